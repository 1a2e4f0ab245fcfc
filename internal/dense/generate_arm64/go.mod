module kindwell/internal/dense/generate_arm64

go 1.26.0
