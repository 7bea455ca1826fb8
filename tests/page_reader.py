"""A page of HTML as a test reads it."""

from html.parser import HTMLParser

VOID = {"meta", "img", "br", "link", "input", "hr"}


class Page(HTMLParser):
    """Tags, attributes and text of a page; closing tags must match."""

    def __init__(self, text):
        super().__init__()
        self.tags, self.open, self.text = [], [], []
        self.feed(text)
        assert self.open == []

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, dict(attrs), tuple(self.open)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.tags.append((tag, dict(attrs), tuple(self.open)))

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        self.text.append(data)

    def all(self, name):
        """Return the attributes of all tags of a name."""
        return [attrs for tag, attrs, _ in self.tags if tag == name]
