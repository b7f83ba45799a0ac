"""The only place that knows the whole program: settings, addresses, the worker."""
