Attribute VB_Name = "Risefall"
' Asks the Risefall service on this machine whether readings rise, fall or only fluctuate.
'
' In a cell:    =TREND_P(G6:G109)   =TREND_P(G6:G109, "rising")   =TREND_CONCLUSION(C6:C109, "rising", "poor < fair < good")
'               =TREND_FACT(G6:G109, "share_of_rises")
' As macros:    JudgeSelection      writes a small table beside what is on the sheet
'               AnnotateWorkbook    stores a copy with new sheets beside the workbook, which itself is never written to
'
' Readings stand in time order, oldest first. Nothing leaves this machine. No reference needs to be set: the objects that
' send and store are found by their names when they are needed. Excel on a Mac has no such objects; see the README.
Option Explicit

Private Const SERVICE As String = "http://127.0.0.1:7373"
Private Const TEST_NAME As String = "cox-stuart"

' ---------------------------------------------------------------- Functions for cells

' The p-value; a sentence if there is none.
Public Function TREND_P(readings As Range, Optional sought As String = "either", Optional grades As String = "") As Variant
    TREND_P = TREND_FACT(readings, "p", sought, grades)
End Function

' rising, falling, not shown or too few.
Public Function TREND_CONCLUSION(readings As Range, Optional sought As String = "either", Optional grades As String = "") As Variant
    TREND_CONCLUSION = TREND_FACT(readings, "conclusion", sought, grades)
End Function

' Any one fact by its name, such as sentence, rises, falls, ties, pairs or share_of_rises.
Public Function TREND_FACT(readings As Range, fact As String, Optional sought As String = "either", Optional grades As String = "") As Variant
    Dim body As String
    body = RequestBody("", RangeAsJson(readings), "", sought, grades)
    TREND_FACT = AsCellValue(Ask("reply=text&give=" & fact, body))
End Function

' ---------------------------------------------------------------- Judge the selection

' The selection has its headings in the first row. If its first column holds dates, they are the moments of the readings.
Public Sub JudgeSelection()
    Dim sought As String, grades As String
    Dim area As Range
    If TypeName(Selection) = "Range" Then Set area = Application.Intersect(Selection.Areas(1), ActiveSheet.UsedRange)
    If area Is Nothing Then
        MsgBox "Select the readings with their headings first.", vbInformation, "Risefall"
        Exit Sub
    End If
    If area.Rows.Count < 2 Then
        MsgBox "Select the readings below their headings too.", vbInformation, "Risefall"
        Exit Sub
    End If
    sought = InputBox("Which change would count as evidence: rising, falling or either?", "Risefall", "either")
    If sought = "" Then Exit Sub
    If HoldsWords(area.Offset(1, 0).Resize(area.Rows.Count - 1)) Then
        grades = InputBox("If a column holds grades, their order, lowest first, such as: poor < fair < good" & vbLf & _
            "Leave this blank for a usual order.", "Risefall")
    End If
    JudgeRange area, sought, grades, FreeCorner(area)
End Sub

' Writes the table of conclusions, one row an indicator, with its upper left cell at the corner.
Public Sub JudgeRange(area As Range, sought As String, grades As String, corner As Range)
    Dim headings As Variant, facts As Variant, answer As String, moments As String, column As Range
    Dim first As Long, index As Long, tableRow As Long, fact As Long
    headings = Array("Indicator", "Conclusion", "p", "Rises", "Falls", "Pairs", "Because")
    facts = Array("conclusion", "p", "rises", "falls", "pairs", "sentence")
    For index = 0 To 6
        corner.Offset(0, index).Value = headings(index)
        corner.Offset(0, index).Font.Bold = True
    Next index
    first = 1
    If IsMoment(area.Cells(2, 1)) Then
        moments = RangeAsJson(BelowHeading(area, 1))
        first = 2
    End If
    For index = first To area.Columns.Count
        tableRow = tableRow + 1
        Set column = BelowHeading(area, index)
        corner.Offset(tableRow, 0).Value = area.Cells(1, index).Value
        answer = Ask("reply=csv", RequestBody(Heading(area, index), RangeAsJson(column), moments, sought, _
            IIf(HoldsWords(column), grades, "")))
        If Left$(answer, 4) = "key," Then
            For fact = 0 To 5
                corner.Offset(tableRow, fact + 1).Value = AsCellValue(FactOf(answer, CStr(facts(fact))))
            Next fact
        Else
            corner.Offset(tableRow, 1).Value = "not judged"
            corner.Offset(tableRow, 6).Value = answer
        End If
    Next index
End Sub

Private Function BelowHeading(area As Range, index As Long) As Range
    Set BelowHeading = area.Cells(2, index).Resize(area.Rows.Count - 1, 1)
End Function

' The heading as one line of text.
Private Function Heading(area As Range, index As Long) As String
    Heading = Replace(Replace(CStr(area.Cells(1, index).Text), vbCr, ""), vbLf, " ")
End Function

' One blank column right of everything on the sheet, so that nothing is written over.
Private Function FreeCorner(area As Range) As Range
    With area.Worksheet.UsedRange
        Set FreeCorner = area.Worksheet.Cells(area.Row, .Column + .Columns.Count + 1)
    End With
End Function

Private Function IsMoment(cell As Range) As Boolean
    If VarType(cell.Value) = vbDate Then IsMoment = (cell.Value2 >= 1)
End Function

' Whether a cell holds a word that is no mark for a missing reading.
Private Function HoldsWords(area As Range) As Boolean
    Dim cell As Range, word As String
    For Each cell In area.Cells
        If VarType(cell.Value) = vbString Then
            word = LCase$(Trim$(cell.Value))
            If Left$(word, 1) <> UCase$(Left$(word, 1)) And InStr(" n/a na n.a. none nil missing ", " " & word & " ") = 0 Then
                HoldsWords = True
                Exit Function
            End If
        End If
    Next cell
End Function

' ---------------------------------------------------------------- Annotate this workbook

Public Sub AnnotateWorkbook()
    Dim files As Object, copyPath As String, folder As String, kind As String, target As String, answer As Variant, count As Long
    Set files = CreateObject("Scripting.FileSystemObject")
    folder = ActiveWorkbook.Path
    kind = LCase$(files.GetExtensionName(ActiveWorkbook.Name))
    If folder = "" Or kind = "" Then
        MsgBox "Save the workbook once, so that its copy can be stored beside it.", vbInformation, "Risefall"
        Exit Sub
    End If
    ' A workbook that is kept online has no folder on this machine.
    If InStr(folder, "://") > 0 Then folder = Environ$("USERPROFILE") & "\Documents"
    copyPath = files.BuildPath(files.GetSpecialFolder(2), files.GetTempName() & "." & kind)
    ActiveWorkbook.SaveCopyAs copyPath
    answer = Send("/annotate?fault=text&file=workbook." & kind, "application/octet-stream", FileBytes(copyPath), True)
    files.DeleteFile copyPath
    If VarType(answer) = vbString Then
        MsgBox answer, vbExclamation, "Risefall"
        Exit Sub
    End If
    If kind <> "xlsm" And kind <> "xltx" And kind <> "xltm" Then kind = "xlsx"
    target = files.BuildPath(folder, files.GetBaseName(ActiveWorkbook.Name) & "-trends")
    Do While files.FileExists(target & IIf(count = 0, "", "-" & count + 1) & "." & kind)
        count = count + 1
    Loop
    target = target & IIf(count = 0, "", "-" & count + 1) & "." & kind
    StoreBytes target, answer
    MsgBox "The annotated copy is stored as" & vbLf & target, vbInformation, "Risefall"
End Sub

Private Function FileBytes(path As String) As Variant
    With CreateObject("ADODB.Stream")
        .Type = 1
        .Open
        .LoadFromFile path
        FileBytes = .Read
        .Close
    End With
End Function

' Stores a new file; one that exists is not written over.
Private Sub StoreBytes(path As String, bytes As Variant)
    With CreateObject("ADODB.Stream")
        .Type = 1
        .Open
        .Write bytes
        .SaveToFile path, 1
        .Close
    End With
End Sub

' ---------------------------------------------------------------- Asking the service

Private Function Ask(presentation As String, body As String) As String
    Ask = Send("/trend/" & TEST_NAME & "?fault=text&" & presentation, "application/json", body, False)
End Function

' Sends a body and gives the answer as text, or as bytes if a file is expected and came. A fault is a sentence.
Private Function Send(path As String, mediaType As String, body As Variant, expectsFile As Boolean) As Variant
#If Mac Then
    Send = "Excel on a Mac cannot send this from a macro; use ask.sh or the page at " & SERVICE & "/"
#Else
    Dim request As Object
    On Error GoTo NoAnswer
    Set request = CreateObject("MSXML2.ServerXMLHTTP.6.0")
    request.setTimeouts 2000, 2000, 120000, 120000
    request.Open "POST", SERVICE & path, False
    request.setRequestHeader "Content-Type", mediaType
    request.send (body)
    If expectsFile And request.Status = 200 And InStr(request.getResponseHeader("Content-Type"), "text/plain") = 0 Then
        Send = request.responseBody
    Else
        Send = request.responseText
    End If
    Exit Function
NoAnswer:
    Send = "The service at " & SERVICE & " does not answer. Start it with: risefall serve"
#End If
End Function

' ---------------------------------------------------------------- Writing JSON

Public Function RequestBody(indicator As String, readings As String, moments As String, sought As String, grades As String) As String
    RequestBody = "{""readings"":" & readings
    If moments <> "" Then RequestBody = RequestBody & ",""moments"":" & moments
    If indicator <> "" Then RequestBody = RequestBody & ",""name"":" & Quoted(indicator)
    If grades <> "" Then RequestBody = RequestBody & ",""grades"":" & Quoted(grades)
    RequestBody = RequestBody & ",""seek"":" & Quoted(sought) & "}"
End Function

' A range as rows of cells. Of whole columns only the rows in use are taken.
Public Function RangeAsJson(area As Range) As String
    Dim inUse As Range, rows() As String, cells() As String, r As Long, c As Long
    Set inUse = Application.Intersect(area, area.Worksheet.UsedRange)
    If inUse Is Nothing Then
        RangeAsJson = "[]"
        Exit Function
    End If
    ReDim rows(1 To inUse.Rows.Count)
    ReDim cells(1 To inUse.Columns.Count)
    For r = 1 To inUse.Rows.Count
        For c = 1 To inUse.Columns.Count
            cells(c) = CellAsJson(inUse.Cells(r, c))
        Next c
        rows(r) = "[" & Join(cells, ",") & "]"
    Next r
    RangeAsJson = "[" & Join(rows, ",") & "]"
End Function

Private Function CellAsJson(cell As Range) As String
    Dim value As Variant
    value = cell.Value
    If IsError(value) Then
        CellAsJson = """#N/A"""
    ElseIf IsEmpty(value) Then
        CellAsJson = "null"
    ElseIf IsMoment(cell) Then
        CellAsJson = MomentAsJson(cell.Value2)
    ElseIf VarType(value) = vbBoolean Then
        CellAsJson = IIf(value, "true", "false")
    ElseIf VarType(value) = vbString Then
        CellAsJson = Quoted(CStr(value))
    Else
        CellAsJson = NumberAsJson(cell.Value2)
    End If
End Function

' A day as 2025-03-31, with the time of day if there is one.
Private Function MomentAsJson(days As Double) As String
    If days = Int(days) Then
        MomentAsJson = """" & Format$(CDate(days), "yyyy-mm-dd") & """"
    Else
        MomentAsJson = """" & Format$(CDate(days), "yyyy-mm-dd\Thh\:nn\:ss") & """"
    End If
End Function

' Str$ writes a decimal point in every language, but no zero before it, which JSON wants.
Private Function NumberAsJson(number As Double) As String
    NumberAsJson = Trim$(Str$(number))
    If Left$(NumberAsJson, 1) = "." Then NumberAsJson = "0" & NumberAsJson
    If Left$(NumberAsJson, 2) = "-." Then NumberAsJson = "-0" & Mid$(NumberAsJson, 2)
End Function

' Text in quotes. What is not plain ASCII is written as \u and four digits, so that no encoding can spoil it.
Private Function Quoted(text As String) As String
    Dim i As Long, code As Long, result As String
    For i = 1 To Len(text)
        code = AscW(Mid$(text, i, 1)) And &HFFFF&
        If code = 34 Or code = 92 Then
            result = result & "\" & ChrW$(code)
        ElseIf code < 32 Or code > 126 Then
            result = result & "\u" & Right$("000" & Hex$(code), 4)
        Else
            result = result & ChrW$(code)
        End If
    Next i
    Quoted = """" & result & """"
End Function

' ---------------------------------------------------------------- Reading answers

' A number if the answer is nothing but one, whatever the language of this machine; else the text.
Private Function AsCellValue(answer As String) As Variant
    Dim i As Long, isNumber As Boolean
    isNumber = answer <> "" And InStr("-0123456789", Left$(answer & " ", 1)) > 0
    For i = 1 To Len(answer)
        If InStr("0123456789.-+eE", Mid$(answer, i, 1)) = 0 Then isNumber = False
    Next i
    If isNumber Then AsCellValue = Val(answer) Else AsCellValue = answer
End Function

' The value of a fact in an answer of lines: key,label,value,unit
Public Function FactOf(answer As String, key As String) As String
    Dim lines As Variant, i As Long
    lines = Split(answer, vbCrLf)
    For i = 0 To UBound(lines)
        If Left$(lines(i), Len(key) + 1) = key & "," Then
            FactOf = FieldOf(CStr(lines(i)), 3)
            Exit Function
        End If
    Next i
End Function

' A field of a line, counted from 1. Commas within quotes do not separate, and a doubled quote stands for one.
Private Function FieldOf(record As String, wanted As Long) As String
    Dim i As Long, field As Long, inQuotes As Boolean, letter As String, previous As String
    field = 1
    For i = 1 To Len(record)
        letter = Mid$(record, i, 1)
        If letter = """" Then
            If previous = """" And Not inQuotes And field = wanted Then FieldOf = FieldOf & letter
            inQuotes = Not inQuotes
        ElseIf letter = "," And Not inQuotes Then
            field = field + 1
        ElseIf field = wanted Then
            FieldOf = FieldOf & letter
        End If
        previous = letter
    Next i
End Function
