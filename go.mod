module bandwright

go 1.26

require (
	fyne.io/fyne/v2 v2.8.1
	github.com/BurntSushi/toml v1.6.0
	github.com/go-gl/mathgl v1.2.0
	github.com/google/go-cmp v0.7.0
	golang.org/x/image v0.30.0
	golang.org/x/sys v0.30.0
	gonum.org/v1/gonum v0.17.0
	pgregory.net/rapid v1.2.0
)

require github.com/spf13/pflag v1.0.10

require golang.org/x/text v0.28.0 // indirect
