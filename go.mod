module shelfward

go 1.26

require (
	codeberg.org/go-pdf/fpdf v0.12.0
	github.com/dominikbraun/graph v0.23.0
	github.com/rogpeppe/go-internal v1.16.0
	github.com/spf13/cobra v1.10.2
	github.com/spf13/pflag v1.0.9
	go.etcd.io/bbolt v1.4.3
	golang.org/x/image v0.40.0
	gopkg.in/yaml.v3 v3.0.1
)

require (
	github.com/inconshreveable/mousetrap v1.1.0 // indirect
	golang.org/x/sys v0.43.0 // indirect
	golang.org/x/text v0.37.0 // indirect
	golang.org/x/tools v0.44.0 // indirect
)
