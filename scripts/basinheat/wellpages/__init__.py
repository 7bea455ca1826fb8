"""The page of the wells: each with its readings, its column and its recovery, drawn as SVG."""
