package web_test

import (
	"io"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"unicode"

	"lossbook/store"
	"lossbook/web"
)

// readmeAddress is where the README's commands expect the server.
const readmeAddress = "127.0.0.1:8470"

// promised is what the answer to each curl of the README must hold.
var promised = []string{`"state":"settled"`, "vin_V,iout_A,", `"openapi":"3.`}

// TestReadmeCommands runs the README's curl commands as they are printed, but for
// the port, against a server with the samples.
func TestReadmeCommands(t *testing.T) {
	text, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	commands := curls(string(text))
	if len(commands) != len(promised) {
		t.Fatalf("the README has %d curl commands, want %d", len(commands), len(promised))
	}
	address := serveSamples(t)
	for i, command := range commands {
		words := shellWords(command)
		answer, err := http.DefaultClient.Do(asRequest(t, words, address))
		if err != nil {
			t.Fatal(err)
		}
		body, err := io.ReadAll(answer.Body)
		answer.Body.Close()
		if err != nil || answer.StatusCode != http.StatusOK || !strings.Contains(string(body), promised[i]) {
			t.Errorf("%s\nstatus %d, error %v, no %s in %.300s", command, answer.StatusCode, err, promised[i], body)
		}
	}
}

// serveSamples starts a server as a first start does, and returns its address.
func serveSamples(t *testing.T) string {
	t.Helper()
	data, err := store.Open(t.Context(), filepath.Join(t.TempDir(), "data.db"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { data.Close() })
	samples, err := web.Samples()
	if err != nil {
		t.Fatal(err)
	}
	if err := data.Seed(t.Context(), samples); err != nil {
		t.Fatal(err)
	}
	server := httptest.NewUnstartedServer(nil)
	address := server.Listener.Addr().String()
	handler, err := web.New(web.Config{Store: data, Log: slog.New(slog.DiscardHandler), Host: address, Evidence: os.DirFS("../testdata")})
	if err != nil {
		t.Fatal(err)
	}
	server.Config.Handler = handler
	server.Start()
	t.Cleanup(server.Close)
	return address
}

var shellBlock = regexp.MustCompile("(?ms)^```sh\n(.*?)^```$")

// curls returns the curl commands of a guide's shell blocks; a quoted line break
// does not end one.
func curls(guide string) (commands []string) {
	for _, block := range shellBlock.FindAllStringSubmatch(guide, -1) {
		command := ""
		for line := range strings.Lines(block[1]) {
			command += line
			if strings.Count(command, "'")%2 == 1 {
				continue
			}
			if strings.HasPrefix(command, "curl ") {
				commands = append(commands, command)
			}
			command = ""
		}
	}
	return commands
}

// shellWords divides a command at blanks outside single quotes, as a shell does.
func shellWords(command string) (words []string) {
	quoted, word := false, ""
	for _, r := range command + " " {
		switch {
		case r == '\'':
			quoted = !quoted
		case unicode.IsSpace(r) && !quoted:
			if word != "" {
				words = append(words, word)
			}
			word = ""
		default:
			word += string(r)
		}
	}
	return words
}

// asRequest is what curl sends for these words; any that it doesn't know fail.
func asRequest(t *testing.T, words []string, address string) *http.Request {
	t.Helper()
	method, url, body, header := http.MethodGet, "", "", http.Header{}
	for i := 1; i < len(words); i++ {
		switch word := words[i]; {
		case word == "-s":
		case word == "-H" && i+1 < len(words):
			i++
			name, value, _ := strings.Cut(words[i], ": ")
			header.Set(name, value)
		case word == "-d" && i+1 < len(words):
			i++
			method, body = http.MethodPost, words[i]
			if header.Get("Content-Type") == "" {
				header.Set("Content-Type", "application/x-www-form-urlencoded")
			}
		case strings.HasPrefix(word, "http://"+readmeAddress+"/"):
			url = strings.Replace(word, readmeAddress, address, 1)
		default:
			t.Fatalf("this test doesn't know what curl does with %q", word)
		}
	}
	r, err := http.NewRequest(method, url, strings.NewReader(body))
	if err != nil {
		t.Fatal(err)
	}
	r.Header = header
	return r
}
