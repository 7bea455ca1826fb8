"""The config, typed once: every setting with its meaning, its range and its default.

Import from the modules (``basinheat.settings.heat``): what is re-exported here would belong to the
code digest of every rule.
"""
