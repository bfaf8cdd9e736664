"""The line: pipe sizes, fittings and the route from source to destination."""
