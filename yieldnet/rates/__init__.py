"""From a cultivation run to rates and yields with their covariance."""
