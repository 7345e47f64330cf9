"""Fronts as interactive charts: a chart for notebooks, a page that opens without a network, a picture."""

from optimizer.charts.page import dashboard_html
from optimizer.charts.picture import front_picture
from optimizer.charts.views import dashboard

__all__ = ["dashboard", "dashboard_html", "front_picture"]
