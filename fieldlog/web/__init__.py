"""The application: assembling it, its gate, its headers, its errors."""
