return true
