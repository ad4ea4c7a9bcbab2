module github.com/qofs/qofs

go 1.25.0
