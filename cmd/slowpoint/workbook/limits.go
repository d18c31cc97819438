package workbook

func (r *reader) readLimits() {}
