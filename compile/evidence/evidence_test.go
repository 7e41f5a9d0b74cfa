package evidence

