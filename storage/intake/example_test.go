package intake_test

import (
	"errors"
	"fmt"
	"io"
	"strings"
	"time"

	"swardbook/storage/intake"
)

func ExampleOpen() {
	content := "time,temp_f,rh\n2024-06-04T05:00,59.0,91\n2024-06-04T06:00,M,90\n2024-06-04T07:00,6l.2,88\n"
	site := intake.Site{OffsetSeconds: -5 * 3600} // times without an offset are 5 h behind UTC
	file, err := intake.Open(strings.NewReader(content), site, intake.How{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer file.Close()
	for {
		row, err := file.Next()
		if errors.Is(err, io.EOF) {
			break
		}
		switch refused, ok := intake.IsRowError(err); {
		case ok:
			fmt.Println(refused)
		case err != nil:
			fmt.Println(err)
			return
		case row.Empty:
			fmt.Printf("line %d: no value\n", row.Line)
		default:
			fmt.Printf("line %d: %s %.1f °C\n", row.Line, time.Unix(row.Reading.At, 0).UTC().Format(time.RFC3339), row.Reading.C)
		}
	}
	fmt.Printf("%s in °%s, %s\n", file.Format, strings.ToUpper(string(file.Units)), file.Clock())
	// Output:
	// line 2: 2024-06-04T10:00:00Z 15.0 °C
	// line 3: no value
	// line 4: "6l.2": the temperature is not a number like 12.5
	// readings in °F, site standard time
}
