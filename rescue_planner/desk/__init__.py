"""The Qt front end. Nothing below it imports Qt."""
