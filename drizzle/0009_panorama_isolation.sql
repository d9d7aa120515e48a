SELECT force_row_level_security();
