' Asks the Risefall service on this machine whether readings rise, fall or only fluctuate. For LibreOffice Calc.
'
' In a cell:    =TREND_P(G6:G109)   =TREND_P(G6:G109;"rising")   =TREND_CONCLUSION(C6:C109;"rising";"poor < fair < good")
'               =TREND_FACT(G6:G109;"share_of_rises")
' As macros:    JudgeSelection      writes a small table beside what is on the sheet
'               AnnotateWorkbook    stores a copy with new sheets beside the workbook, which itself is never written to
'
' Readings stand in time order, oldest first. Nothing leaves this machine.
Option Explicit

Private Const SERVICE = "http://127.0.0.1:7373"
Private Const TEST_NAME = "cox-stuart"

' ---------------------------------------------------------------- Functions for cells

' The p-value; a sentence if there is none.
Function TREND_P(readings, Optional sought, Optional grades)
    TREND_P = OneFact(readings, "p", IIf(IsMissing(sought), "", sought), IIf(IsMissing(grades), "", grades))
End Function

' rising, falling, not shown or too few.
Function TREND_CONCLUSION(readings, Optional sought, Optional grades)
    TREND_CONCLUSION = OneFact(readings, "conclusion", IIf(IsMissing(sought), "", sought), IIf(IsMissing(grades), "", grades))
End Function

' Any one fact by its name, such as sentence, rises, falls, ties, pairs or share_of_rises.
Function TREND_FACT(readings, fact, Optional sought, Optional grades)
    TREND_FACT = OneFact(readings, fact, IIf(IsMissing(sought), "", sought), IIf(IsMissing(grades), "", grades))
End Function

Private Function OneFact(readings, fact, sought, grades)
    Dim body As String
    body = RequestBody("", ValuesAsJson(readings), "", IIf(sought = "", "either", sought), grades)
    OneFact = AsCellValue(Ask("reply=text&give=" & fact, body))
End Function

' ---------------------------------------------------------------- Judge the selection

' The selection has its headings in the first row. If its first column holds dates, they are the moments of the readings.
Sub JudgeSelection
    Dim area, sought As String, grades As String
    area = ThisComponent.CurrentSelection
    If Not area.supportsService("com.sun.star.sheet.SheetCellRange") Then
        MsgBox "Select the readings with their headings first.", 64, "Risefall"
        Exit Sub
    End If
    area = InUse(area)
    If area.Rows.Count < 2 Then
        MsgBox "Select the readings below their headings too.", 64, "Risefall"
        Exit Sub
    End If
    sought = InputBox("Which change would count as evidence: rising, falling or either?", "Risefall", "either")
    If sought = "" Then Exit Sub
    If HoldsWords(BelowHeadings(area, 0, area.Columns.Count - 1)) Then
        grades = InputBox("If a column holds grades, their order, lowest first, such as: poor < fair < good" & Chr(10) & _
            "Leave this blank for a usual order.", "Risefall")
    End If
    JudgeRange(ThisComponent, area, sought, grades, FreeCorner(area))
End Sub

' Writes the table of conclusions, one row an indicator, with its upper left cell at the corner.
Sub JudgeRange(book, area, sought As String, grades As String, corner)
    Dim headings, facts, answer As String, moments As String, column, sheet, given As String
    Dim first As Long, index As Long, tableRow As Long, leftmost As Long, fact As Long
    headings = Array("Indicator", "Conclusion", "p", "Rises", "Falls", "Pairs", "Because")
    facts = Array("conclusion", "p", "rises", "falls", "pairs", "sentence")
    sheet = corner.Spreadsheet
    leftmost = corner.CellAddress.Column
    tableRow = corner.CellAddress.Row
    For index = 0 To 6
        sheet.getCellByPosition(leftmost + index, tableRow).String = headings(index)
        sheet.getCellByPosition(leftmost + index, tableRow).CharWeight = com.sun.star.awt.FontWeight.BOLD
    Next index
    first = 0
    If IsMoment(book, area.getCellByPosition(0, 1)) Then
        moments = RangeAsJson(book, BelowHeadings(area, 0, 0))
        first = 1
    End If
    For index = first To area.Columns.Count - 1
        tableRow = tableRow + 1
        column = BelowHeadings(area, index, index)
        given = ""
        If HoldsWords(column) Then given = grades
        sheet.getCellByPosition(leftmost, tableRow).String = Heading(area, index)
        answer = Ask("reply=csv", RequestBody(Heading(area, index), RangeAsJson(book, column), moments, sought, given))
        If Left(answer, 4) = "key," Then
            For fact = 0 To 5
                WriteCell(sheet.getCellByPosition(leftmost + fact + 1, tableRow), AsCellValue(FactOf(answer, facts(fact))))
            Next fact
        Else
            sheet.getCellByPosition(leftmost + 1, tableRow).String = "not judged"
            sheet.getCellByPosition(leftmost + 6, tableRow).String = answer
        End If
    Next index
End Sub

Private Sub WriteCell(cell, content)
    If VarType(content) = 8 Then
        cell.String = content
    Else
        cell.Value = content
    End If
End Sub

Private Function BelowHeadings(area, first As Long, last As Long)
    BelowHeadings = area.getCellRangeByPosition(first, 1, last, area.Rows.Count - 1)
End Function

' The heading as one line of text.
Private Function Heading(area, index As Long) As String
    Heading = Replace(area.getCellByPosition(index, 0).String, Chr(10), " ")
End Function

' Of whole columns only the rows in use.
Private Function InUse(area)
    Dim cursor, last As Long
    cursor = area.Spreadsheet.createCursor()
    cursor.gotoEndOfUsedArea(False)
    last = cursor.RangeAddress.EndRow - area.RangeAddress.StartRow
    If last < 0 Then last = 0
    If last > area.Rows.Count - 1 Then last = area.Rows.Count - 1
    InUse = area.getCellRangeByPosition(0, 0, area.Columns.Count - 1, last)
End Function

' One blank column right of everything on the sheet, so that nothing is written over.
Private Function FreeCorner(area)
    Dim cursor
    cursor = area.Spreadsheet.createCursor()
    cursor.gotoEndOfUsedArea(False)
    FreeCorner = area.Spreadsheet.getCellByPosition(cursor.RangeAddress.EndColumn + 2, area.RangeAddress.StartRow)
End Function

Private Function IsMoment(book, cell) As Boolean
    IsMoment = False
    If KindOf(cell) = "number" Then
        IsMoment = cell.Value >= 1 And (book.NumberFormats.getByKey(cell.NumberFormat).Type And com.sun.star.util.NumberFormat.DATE) <> 0
    End If
End Function

Private Function KindOf(cell) As String
    If cell.getError() <> 0 Then
        KindOf = "error"
    ElseIf cell.Type = com.sun.star.table.CellContentType.EMPTY Then
        KindOf = "empty"
    ElseIf cell.Type = com.sun.star.table.CellContentType.TEXT Then
        KindOf = "text"
    ElseIf cell.Type = com.sun.star.table.CellContentType.VALUE Then
        KindOf = "number"
    ElseIf cell.FormulaResultType2 = com.sun.star.sheet.FormulaResult.STRING Then
        KindOf = "text"
    Else
        KindOf = "number"
    End If
End Function

' Whether a cell holds a word that is no mark for a missing reading.
Private Function HoldsWords(area) As Boolean
    Dim r As Long, c As Long, word As String, cell
    HoldsWords = False
    For r = 0 To area.Rows.Count - 1
        For c = 0 To area.Columns.Count - 1
            cell = area.getCellByPosition(c, r)
            If KindOf(cell) = "text" Then
                word = LCase(Trim(cell.String))
                If Left(word, 1) <> UCase(Left(word, 1)) And InStr(" n/a na n.a. none nil missing ", " " & word & " ") = 0 Then
                    HoldsWords = True
                    Exit Function
                End If
            End If
        Next c
    Next r
End Function

' ---------------------------------------------------------------- Annotate this workbook

Sub AnnotateWorkbook
    If Not ThisComponent.hasLocation() Or ThisComponent.isModified() Then
        MsgBox "Save the workbook first. What is stored is what gets annotated.", 64, "Risefall"
        Exit Sub
    End If
    MsgBox AnnotateFile(ThisComponent.Location), 64, "Risefall"
End Sub

' Sends the stored file as it is, stores the answer as a new file beside it, and says where.
Function AnnotateFile(address As String) As String
    Dim files, pipe, kind As String, stem As String, target As String, count As Long, fault As String
    files = createUnoService("com.sun.star.ucb.SimpleFileAccess")
    stem = WithoutEnding(address)
    kind = LCase(Mid(address, Len(stem) + 2))
    pipe = createUnoService("com.sun.star.io.Pipe")
    fault = Send("/annotate?fault=text&file=workbook." & kind, "application/octet-stream", files.openFileRead(address), pipe)
    If fault <> "" Then
        AnnotateFile = fault
        Exit Function
    End If
    If kind <> "xlsm" And kind <> "xltx" And kind <> "xltm" Then kind = "xlsx"
    target = stem & "-trends." & kind
    count = 1
    Do While files.exists(target)
        count = count + 1
        target = stem & "-trends-" & count & "." & kind
    Loop
    files.writeFile(target, pipe)
    pipe.closeInput()
    If IsPackage(files, target) Then
        AnnotateFile = "The annotated copy is stored as" & Chr(10) & ConvertFromURL(target)
    Else
        AnnotateFile = TextOf(files.openFileRead(target))
        files.kill(target)
    End If
End Function

' Workbooks are packages, whose first two bytes are the letters PK; anything else is a sentence.
Private Function IsPackage(files, address As String) As Boolean
    Dim stream, bytes()
    stream = files.openFileRead(address)
    IsPackage = False
    If stream.readBytes(bytes, 2) = 2 Then IsPackage = bytes(0) = 80 And bytes(1) = 75
    stream.closeInput()
End Function

Private Function WithoutEnding(address As String) As String
    Dim i As Long
    WithoutEnding = address
    For i = Len(address) To 1 Step -1
        If Mid(address, i, 1) = "/" Then Exit Function
        If Mid(address, i, 1) = "." Then
            WithoutEnding = Left(address, i - 1)
            Exit Function
        End If
    Next i
End Function

' ---------------------------------------------------------------- Asking the service

Private Function Ask(presentation As String, body As String) As String
    Dim sent, answered, writer, fault As String
    sent = createUnoService("com.sun.star.io.Pipe")
    writer = createUnoService("com.sun.star.io.TextOutputStream")
    writer.setOutputStream(sent)
    writer.setEncoding("UTF-8")
    writer.writeString(body)
    writer.closeOutput()
    answered = createUnoService("com.sun.star.io.Pipe")
    fault = Send("/trend/" & TEST_NAME & "?fault=text&" & presentation, "application/json", sent, answered)
    If fault = "" Then
        Ask = TextOf(answered)
    Else
        Ask = fault
    End If
End Function

' Sends all of one stream and collects the answer in another. The result is blank, or a sentence if there was no answer.
Private Function Send(path As String, mediaType As String, sent, answered) As String
    Dim broker, content, argument, order
    argument = createUnoStruct("com.sun.star.ucb.PostCommandArgument2")
    argument.Source = sent
    argument.Sink = answered
    argument.MediaType = mediaType
    order = createUnoStruct("com.sun.star.ucb.Command")
    order.Name = "post"
    order.Handle = -1
    order.Argument = argument
    On Error Goto NoAnswer
    broker = createUnoService("com.sun.star.ucb.UniversalContentBroker")
    content = broker.queryContent(broker.createContentIdentifier(SERVICE & path))
    content.execute(order, 0, Nothing)
    answered.closeOutput()
    Send = ""
    Exit Function
NoAnswer:
    Send = "The service at " & SERVICE & " does not answer. Start it with: risefall serve"
End Function

Private Function TextOf(stream) As String
    Dim reader
    reader = createUnoService("com.sun.star.io.TextInputStream")
    reader.setInputStream(stream)
    reader.setEncoding("UTF-8")
    TextOf = reader.readString(Array(), False)
    reader.closeInput()
End Function

' ---------------------------------------------------------------- Writing JSON

Function RequestBody(indicator As String, readings As String, moments As String, sought As String, grades As String) As String
    Dim body As String
    body = "{""readings"":" & readings
    If moments <> "" Then body = body & ",""moments"":" & moments
    If indicator <> "" Then body = body & ",""name"":" & Quoted(indicator)
    If grades <> "" Then body = body & ",""grades"":" & Quoted(grades)
    RequestBody = body & ",""seek"":" & Quoted(sought) & "}"
End Function

' A range of a sheet as rows of cells.
Function RangeAsJson(book, area) As String
    Dim r As Long, c As Long, rows(), cells()
    ReDim rows(area.Rows.Count - 1)
    ReDim cells(area.Columns.Count - 1)
    For r = 0 To area.Rows.Count - 1
        For c = 0 To area.Columns.Count - 1
            cells(c) = CellAsJson(book, area.getCellByPosition(c, r))
        Next c
        rows(r) = "[" & Join(cells, ",") & "]"
    Next r
    RangeAsJson = "[" & Join(rows, ",") & "]"
End Function

Private Function CellAsJson(book, cell) As String
    Select Case KindOf(cell)
    Case "error"
        CellAsJson = Quoted("#N/A")
    Case "empty"
        CellAsJson = "null"
    Case "text"
        CellAsJson = Quoted(cell.String)
    Case Else
        If IsMoment(book, cell) Then
            CellAsJson = MomentAsJson(cell.Value)
        Else
            CellAsJson = NumberAsJson(cell.Value)
        End If
    End Select
End Function

' What a function in a cell is given: the values of a range, or of a single cell.
Private Function ValuesAsJson(values) As String
    Dim r As Long, c As Long, rows(), cells()
    If Not IsArray(values) Then
        ValuesAsJson = "[" & ValueAsJson(values) & "]"
        Exit Function
    End If
    ReDim rows(UBound(values, 1) - LBound(values, 1))
    ReDim cells(UBound(values, 2) - LBound(values, 2))
    For r = LBound(values, 1) To UBound(values, 1)
        For c = LBound(values, 2) To UBound(values, 2)
            cells(c - LBound(values, 2)) = ValueAsJson(values(r, c))
        Next c
        rows(r - LBound(values, 1)) = "[" & Join(cells, ",") & "]"
    Next r
    ValuesAsJson = "[" & Join(rows, ",") & "]"
End Function

Private Function ValueAsJson(value) As String
    Select Case VarType(value)
    Case 0, 1
        ValueAsJson = "null"
    Case 8
        ValueAsJson = Quoted(value)
    Case 10
        ValueAsJson = Quoted("#N/A")
    Case Else
        ValueAsJson = NumberAsJson(value)
    End Select
End Function

' A day as 2025-03-31, with the time of day if there is one.
Private Function MomentAsJson(days As Double) As String
    Dim moment As Date, written As String
    moment = CDate(days)
    written = Format(Year(moment), "0000") & "-" & Format(Month(moment), "00") & "-" & Format(Day(moment), "00")
    If days <> Int(days) Then
        written = written & "T" & Format(Hour(moment), "00") & ":" & Format(Minute(moment), "00") & ":" & Format(Second(moment), "00")
    End If
    MomentAsJson = Quoted(written)
End Function

' Str writes a decimal point in every language; JSON wants a zero before it.
Private Function NumberAsJson(number) As String
    Dim digits As String
    digits = Trim(Str(number))
    If Left(digits, 1) = "." Then digits = "0" & digits
    If Left(digits, 2) = "-." Then digits = "-0" & Mid(digits, 2)
    NumberAsJson = digits
End Function

' Text in quotes. What is not plain ASCII is written as \u and four digits, so that no encoding can spoil it.
Private Function Quoted(text) As String
    Dim i As Long, code As Long, result As String
    For i = 1 To Len(text)
        code = Asc(Mid(text, i, 1))
        If code < 0 Then code = code + 65536
        If code = 34 Or code = 92 Then
            result = result & "\" & Chr(code)
        ElseIf code < 32 Or code > 126 Then
            result = result & "\u" & Right("000" & Hex(code), 4)
        Else
            result = result & Chr(code)
        End If
    Next i
    Quoted = """" & result & """"
End Function

' ---------------------------------------------------------------- Reading answers

' A number if the answer is nothing but one, whatever the language of this office; else the text.
Private Function AsCellValue(answer As String)
    Dim i As Long, isNumber As Boolean
    isNumber = answer <> "" And InStr("-0123456789", Left(answer & " ", 1)) > 0
    For i = 1 To Len(answer)
        If InStr("0123456789.-+eE", Mid(answer, i, 1)) = 0 Then isNumber = False
    Next i
    If isNumber Then
        AsCellValue = Val(answer)
    Else
        AsCellValue = answer
    End If
End Function

' The value of a fact in an answer of lines: key,label,value,unit
Function FactOf(answer As String, key As String) As String
    Dim lines, i As Long
    lines = Split(answer, Chr(13) & Chr(10))
    FactOf = ""
    For i = 0 To UBound(lines)
        If Left(lines(i), Len(key) + 1) = key & "," Then
            FactOf = FieldOf(lines(i), 3)
            Exit Function
        End If
    Next i
End Function

' A field of a line, counted from 1. Commas within quotes do not separate, and a doubled quote stands for one.
Private Function FieldOf(record As String, wanted As Long) As String
    Dim i As Long, field As Long, inQuotes As Boolean, letter As String, previous As String, result As String
    field = 1
    inQuotes = False
    For i = 1 To Len(record)
        letter = Mid(record, i, 1)
        If letter = """" Then
            If previous = """" And Not inQuotes And field = wanted Then result = result & letter
            inQuotes = Not inQuotes
        ElseIf letter = "," And Not inQuotes Then
            field = field + 1
        ElseIf field = wanted Then
            result = result & letter
        End If
        previous = letter
    Next i
    FieldOf = result
End Function
