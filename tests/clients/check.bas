' Runs the client module in a real office: functions in cells, the table beside a range, and an annotated copy.
' What was found is written to found.txt, one value a line.
Option Explicit

Sub Main
    Dim folder As String, book, weekly, scratch, i As Long, c As Long, corner, found, files, hidden(0) As New com.sun.star.beans.PropertyValue
    Dim formulas
    On Error Goto Failed
    folder = ConvertToURL(Environ("RISEFALL_CHECK"))
    files = createUnoService("com.sun.star.ucb.SimpleFileAccess")
    found = createUnoService("com.sun.star.io.TextOutputStream")
    found.setOutputStream(files.openFileWrite(folder & "/found.txt"))
    found.setEncoding("UTF-8")
    hidden(0).Name = "Hidden"
    hidden(0).Value = True
    book = StarDesktop.loadComponentFromURL(folder & "/visits.xlsx", "_blank", 0, hidden())
    weekly = book.Sheets.getByName("Weekly readings")
    book.Sheets.insertNewByName("Scratch", book.Sheets.Count)
    scratch = book.Sheets.getByName("Scratch")
    formulas = Array( _
        "=TREND_P($'Weekly readings'.G6:G109)", _
        "=TREND_P($'Weekly readings'.G6:G109;""rising"")", _
        "=TREND_CONCLUSION($'Weekly readings'.C6:C109;""rising"";""poor < fair < good < very good"")", _
        "=TREND_FACT($'Weekly readings'.I6:I109;""falls"")", _
        "=TREND_FACT($'Weekly readings'.G6:G109;""slant"")", _
        "=TREND_P($'Weekly readings'.D6:D109)+1")
    For i = 0 To UBound(formulas)
        scratch.getCellByPosition(0, i).Formula = formulas(i)
        found.writeString("cell " & Shown(scratch.getCellByPosition(0, i)) & Chr(10))
    Next i
    found.writeString("body " & BodyOfFixture(book, scratch) & Chr(10))
    corner = weekly.getCellRangeByName("O5")
    JudgeRange(book, weekly.getCellRangeByName("A5:L109"), "either", "poor < fair < good < very good", weekly.getCellByPosition(14, 4))
    For i = 4 To 15
        found.writeString("table ")
        For c = 14 To 20
            found.writeString(Shown(weekly.getCellByPosition(c, i)) & Chr(9))
        Next c
        found.writeString(Chr(10))
    Next i
    found.writeString("annotate " & Replace(AnnotateFile(folder & "/visits.xlsx"), Chr(10), " ") & Chr(10))
    found.writeString("annotate " & Replace(AnnotateFile(folder & "/visits.xlsx"), Chr(10), " ") & Chr(10))
    found.writeString("annotate " & Replace(AnnotateFile(folder & "/refused.xlsx"), Chr(10), " ") & Chr(10))
    book.close(True)
    found.closeOutput()
    StarDesktop.terminate()
    Exit Sub
Failed:
    found.writeString("error " & Err & " line " & Erl & ": " & Error & Chr(10))
    found.closeOutput()
    StarDesktop.terminate()
End Sub

' Every kind of content that a cell can have, as both macros must write it.
Function BodyOfFixture(book, sheet) As String
    Dim dates, day
    sheet.getCellByPosition(4, 0).Value = 45748
    sheet.getCellByPosition(4, 1).Value = 45749.5
    dates = sheet.getCellRangeByName("E1:E2")
    dates.NumberFormat = book.NumberFormats.getStandardFormat(com.sun.star.util.NumberFormat.DATETIME, book.CharLocale)
    sheet.getCellByPosition(5, 0).Value = 0.5
    sheet.getCellByPosition(5, 1).Value = -0.25
    sheet.getCellByPosition(6, 0).Formula = "=1/0"
    sheet.getCellByPosition(7, 0).String = "say ""fair"" \ " & Chr(233) & Chr(8804) & "5"
    sheet.getCellByPosition(7, 1).Value = 1234567.891
    sheet.getCellByPosition(8, 0).Formula = "=""<0.5"""
    sheet.getCellByPosition(8, 1).Value = 0.00000125
    BodyOfFixture = RequestBody("Wait (min)", RangeAsJson(book, sheet.getCellRangeByName("F1:I2")), _
        RangeAsJson(book, dates), "rising", "poor < fair")
End Function

' Numbers stand for themselves and text in quotes, so that one cannot pass for the other.
Function Shown(cell) As String
    If cell.getError() <> 0 Then
        Shown = "error " & cell.getError()
    ElseIf KindOf(cell) = "text" Then
        Shown = """" & cell.String & """"
    Else
        Shown = Trim(Str(cell.Value))
    End If
End Function
