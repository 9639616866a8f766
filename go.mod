module halfplane

go 1.26.8
