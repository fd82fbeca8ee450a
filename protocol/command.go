package protocol

import "bytes"

// ParseCommand reads one command, given without its LF; one CR at its end is
// ignored. When it is refused after its check was found good, Verb and Token
// of the returned command are set as far as they could be read, and Verb is ""
// when the device cannot answer with "wont" (SPEC 7.3).
func ParseCommand(line []byte) (Command, *SyntaxError) {
	if len(line) >= MaxCommand {
		return Command{}, refuse(TooLong, "2.4", "more than %d bytes with the LF", MaxCommand)
	}
	line = dropCR(line)
	if string(line) == "who" {
		return Command{Verb: Who, Bare: true}, nil
	}
	body, err := unseal(line)
	if err != nil {
		return Command{}, err
	}
	word, _, _ := bytes.Cut(body, []byte{' '})
	verb, clause := verbOf(word)
	if verb == "" {
		return answerable(body), refuse(BadWord, "2.8", "%q is not a command of version 1", word)
	}
	f := cut(body, clause)
	if verb == Pace {
		f.count(clause, 4, 4)
	} else {
		f.count(clause, 2, 2)
	}
	c := Command{Verb: verb, Token: byte(f.hex(f.at[1], 2))}
	if verb == Pace {
		c.Channel = f.letter(f.at[2], 'a', 'z')
		c.Period = uint32(f.decimal(f.at[3], 1, maxDecimal, clause))
	}
	if f.err != nil {
		return answerable(body), f.err
	}
	return c, nil
}

// verbOf is the verb and its clause, or "".
func verbOf(word []byte) (Verb, string) {
	switch string(word) {
	case "who":
		return Who, "7.4"
	case "run":
		return Run, "7.5"
	case "rest":
		return Rest, "7.6"
	case "pace":
		return Pace, "7.7"
	case "echo":
		return EchoMe, "7.8"
	}
	return "", ""
}

// answerable reads word and token of a refused command, or nothing.
func answerable(body []byte) Command {
	word, rest, _ := bytes.Cut(body, []byte{' '})
	token, _, _ := bytes.Cut(rest, []byte{' '})
	v, upper, ok := hexValue(token)
	if !isWord(word) || !ok || upper || len(token) != 2 {
		return Command{}
	}
	return Command{Verb: Verb(word), Token: byte(v)}
}
