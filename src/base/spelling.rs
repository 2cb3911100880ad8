//! Which letters does a file or a font have? Printable ASCII; everything else is spelt out the same way everywhere.

/// Text in printable ASCII: Greek, accents and signs spelt out; what is left becomes `?`. Also says which characters became `?`.
pub fn spelt_out(text: &str) -> (String, Vec<char>) {
    let mut lost = Vec::new();
    let mut out = String::new();
    for c in text.chars() {
        let spelling = match c {
            '_' | '\u{2010}'..='\u{2015}' | '\u{2212}' => "-",
            '°' => " deg",
            '±' => "+/-",
            'µ' | 'μ' => "u",
            'Ω' | '\u{2126}' => "ohm",
            'ε' | '\u{3f5}' => "er",
            'λ' => "lambda",
            'φ' | 'Φ' => "phi",
            '×' => "x",
            '·' | '•' => ".",
            '‘' | '’' => "'",
            '“' | '”' => "\"",
            '…' => "...",
            '²' => "2",
            '³' => "3",
            '½' => "1/2",
            '¼' => "1/4",
            'à' | 'á' | 'â' | 'ã' | 'å' => "a",
            'À' | 'Á' | 'Â' | 'Ã' | 'Å' => "A",
            'ä' | 'æ' => "ae",
            'Ä' | 'Æ' => "Ae",
            'ç' => "c",
            'Ç' => "C",
            'è' | 'é' | 'ê' | 'ë' => "e",
            'È' | 'É' | 'Ê' | 'Ë' => "E",
            'ì' | 'í' | 'î' | 'ï' => "i",
            'Ì' | 'Í' | 'Î' | 'Ï' => "I",
            'ñ' => "n",
            'Ñ' => "N",
            'ò' | 'ó' | 'ô' | 'õ' => "o",
            'Ò' | 'Ó' | 'Ô' | 'Õ' => "O",
            'ö' | 'ø' | 'œ' => "oe",
            'Ö' | 'Ø' | 'Œ' => "Oe",
            'ß' => "ss",
            'ù' | 'ú' | 'û' => "u",
            'Ù' | 'Ú' | 'Û' => "U",
            'ü' => "ue",
            'Ü' => "Ue",
            'ý' | 'ÿ' => "y",
            'ł' => "l",
            'Ł' => "L",
            'š' => "s",
            'Š' => "S",
            'ž' => "z",
            'Ž' => "Z",
            'č' | 'ć' => "c",
            'Č' | 'Ć' => "C",
            ' ' => " ",
            c if c.is_whitespace() => " ",
            c if c.is_ascii_graphic() => {
                out.push(c);
                continue;
            }
            c => {
                lost.push(c);
                "?"
            }
        };
        out.push_str(spelling);
    }
    (out.trim().to_string(), lost)
}
