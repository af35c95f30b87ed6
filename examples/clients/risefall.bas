REM Risefall from LibreOffice Basic.
REM
REM Tools > Macros > Edit Macros, paste this into a module of My Macros > Standard, and start the service first
REM (risefall serve). In a cell:      =TRENDFACT(B2:B53; "p")
REM For a selected column of readings: Tools > Macros > Run Macro > JudgeSelection.

Option Explicit

Const SERVICE = "http://127.0.0.1:7373"

REM One fact of the Cox-Stuart test for a range: "p", "conclusion", "sentence", "share_of_rises", ...
Function TrendFact(Readings, Optional Fact As String) As Variant
    If IsMissing(Fact) Then Fact = "conclusion"
    Dim Answer As String
    Answer = Post("/trend/cox-stuart?reply=text&fault=text&give=" & Fact, "{""readings"": " & AsJson(Readings) & "}")
    Answer = Trim(Replace(Answer, Chr(10), " "))
    If IsPlainNumber(Answer) Then
        TrendFact = Val(Answer)
    Else
        TrendFact = Answer
    End If
End Function

REM Judges the selected column and writes a small table to its right, into cells that are empty.
Sub JudgeSelection
    JudgeRange(ThisComponent.CurrentSelection)
End Sub

Sub JudgeRange(Cells As Object)
    Dim Facts, Labels, I As Integer, Row As Long, Column As Long, Sheet As Object, Readings
    Facts = Array("conclusion", "sentence", "p", "rises", "falls", "ties")
    Labels = Array("Conclusion", "In words", "p", "Rises", "Falls", "Ties")
    Sheet = Cells.Spreadsheet
    Row = Cells.RangeAddress.StartRow
    Column = Cells.RangeAddress.EndColumn + 2
    Readings = Cells.getDataArray()
    For I = 0 To UBound(Facts)
        If Sheet.getCellByPosition(Column, Row + I).String <> "" Or Sheet.getCellByPosition(Column + 1, Row + I).String <> "" Then
            MsgBox "The cells to the right of the selection are not empty.", 48, "Risefall"
            Exit Sub
        End If
    Next I
    For I = 0 To UBound(Facts)
        Dim Value
        Value = TrendFact(Readings, Facts(I))
        Sheet.getCellByPosition(Column, Row + I).String = Labels(I)
        If VarType(Value) = 8 Then
            Sheet.getCellByPosition(Column + 1, Row + I).String = Value
        Else
            Sheet.getCellByPosition(Column + 1, Row + I).Value = Value
        End If
    Next I
End Sub

REM A range as JSON, row by row: numbers, texts, and null for empty cells.
REM A cell function gets an array that counts from 1; a cell range gives rows of cells that count from 0.
Function AsJson(Readings) As String
    Dim Text As String, R As Long, C As Long, Rows As Long
    If Not IsArray(Readings) Then
        AsJson = "[" & OneAsJson(Readings) & "]"
        Exit Function
    End If
    Text = "["
    For R = LBound(Readings) To UBound(Readings)
        If R > LBound(Readings) Then Text = Text & ","
        Text = Text & "["
        If IsRowOfCells(Readings, R) Then
            For C = LBound(Readings(R)) To UBound(Readings(R))
                If C > LBound(Readings(R)) Then Text = Text & ","
                Text = Text & OneAsJson(Readings(R)(C))
            Next C
        Else
            For C = LBound(Readings, 2) To UBound(Readings, 2)
                If C > LBound(Readings, 2) Then Text = Text & ","
                Text = Text & OneAsJson(Readings(R, C))
            Next C
        End If
        Text = Text & "]"
    Next R
    AsJson = Text & "]"
End Function

Function IsRowOfCells(Readings, R As Long) As Boolean
    On Error GoTo TwoDimensions
    IsRowOfCells = IsArray(Readings(R))
    Exit Function
TwoDimensions:
    IsRowOfCells = False
End Function

Function OneAsJson(Value) As String
    If IsEmpty(Value) Then
        OneAsJson = "null"
    ElseIf VarType(Value) = 8 Then
        If Value = "" Then
            OneAsJson = "null"
        Else
            Value = Replace(Replace(Value, "\", "\\"), """", "\""")
            OneAsJson = """" & Replace(Replace(Value, Chr(13), " "), Chr(10), " ") & """"
        End If
    Else
        REM Str writes a decimal point whatever the locale.
        OneAsJson = Trim(Str(Value))
    End If
End Function

Function IsPlainNumber(Text As String) As Boolean
    Dim I As Integer
    IsPlainNumber = Len(Text) > 0
    For I = 1 To Len(Text)
        If InStr("0123456789+-.eE", Mid(Text, I, 1)) = 0 Then IsPlainNumber = False
    Next I
    If IsPlainNumber And InStr("0123456789", Right(Text, 1)) = 0 Then IsPlainNumber = False
End Function

REM Posts JSON with the office's own client and returns the answer's text.
Function Post(Path As String, Body As String) As String
    Dim Provider As Object, Content As Object, Identifier As Object
    Dim Source As Object, Sink As Object, Writer As Object, Reader As Object
    Dim Argument As New com.sun.star.ucb.PostCommandArgument2
    Dim Command As New com.sun.star.ucb.Command
    Provider = createUnoService("com.sun.star.ucb.UniversalContentBroker")
    Identifier = Provider.createContentIdentifier(SERVICE & Path)
    Content = Provider.queryContent(Identifier)
    Source = createUnoService("com.sun.star.io.Pipe")
    Writer = createUnoService("com.sun.star.io.TextOutputStream")
    Writer.setOutputStream(Source)
    Writer.setEncoding("UTF-8")
    Writer.writeString(Body)
    Writer.closeOutput()
    Sink = createUnoService("com.sun.star.io.Pipe")
    Argument.Source = Source
    Argument.Sink = Sink
    Argument.MediaType = "application/json"
    Argument.Referer = ""
    Command.Name = "post"
    Command.Handle = -1
    Command.Argument = Argument
    Content.execute(Command, 0, Nothing)
    Reader = createUnoService("com.sun.star.io.TextInputStream")
    Reader.setInputStream(Sink)
    Reader.setEncoding("UTF-8")
    Dim Answer As String
    Do While Not Reader.isEOF()
        If Answer <> "" Then Answer = Answer & Chr(10)
        Answer = Answer & Reader.readLine()
    Loop
    Post = Answer
End Function
