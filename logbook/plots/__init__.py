"""Charts and bars drawn with Matplotlib, one module for each sort of drawing."""
