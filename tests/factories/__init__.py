"""Records for the tests, made by the services like anybody else's. The values are invented."""
