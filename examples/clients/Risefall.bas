Attribute VB_Name = "Risefall"
' Risefall from Visual Basic for Applications.
'
' Alt+F11, File > Import File, choose this file, and start the service first (risefall serve).
' In a cell:                          =TrendFact(B2:B53, "p")
' For a selected column of readings:  Alt+F8, JudgeSelection.
'
' Late bound: no reference has to be set. It needs Windows; on a Mac, which has no MSXML2, use the
' command line or the service's page instead.
Option Explicit

Private Const SERVICE As String = "http://127.0.0.1:7373"

' One fact of the Cox-Stuart test for a range: "p", "conclusion", "sentence", "share_of_rises", ...
Public Function TrendFact(Readings As Range, Optional Fact As String = "conclusion") As Variant
    Dim Answer As String
    Answer = Trim$(Replace(Post("/trend/cox-stuart?reply=text&fault=text&give=" & Fact, _
        "{""readings"": " & AsJson(Readings) & "}"), vbLf, " "))
    If IsPlainNumber(Answer) Then
        TrendFact = Val(Answer)
    Else
        TrendFact = Answer
    End If
End Function

' Judges the selected column and writes a small table to its right, into cells that are empty.
Public Sub JudgeSelection()
    Dim Cells As Range, Target As Range, Facts As Variant, Labels As Variant, I As Long
    If TypeName(Selection) <> "Range" Then Exit Sub
    Set Cells = Selection
    Facts = Array("conclusion", "sentence", "p", "rises", "falls", "ties")
    Labels = Array("Conclusion", "In words", "p", "Rises", "Falls", "Ties")
    Set Target = Cells.Cells(1, Cells.Columns.Count).Offset(0, 2).Resize(UBound(Facts) + 1, 2)
    If Application.WorksheetFunction.CountA(Target) > 0 Then
        MsgBox "The cells to the right of the selection are not empty.", vbExclamation, "Risefall"
        Exit Sub
    End If
    For I = 0 To UBound(Facts)
        Target.Cells(I + 1, 1).Value = Labels(I)
        Target.Cells(I + 1, 2).Value = TrendFact(Cells, CStr(Facts(I)))
    Next I
End Sub

' A range as JSON, row by row: numbers, texts, and null for empty cells.
Private Function AsJson(Readings As Range) As String
    Dim R As Long, C As Long, Text As String
    Text = "["
    For R = 1 To Readings.Rows.Count
        If R > 1 Then Text = Text & ","
        Text = Text & "["
        For C = 1 To Readings.Columns.Count
            If C > 1 Then Text = Text & ","
            Text = Text & OneAsJson(Readings.Cells(R, C))
        Next C
        Text = Text & "]"
    Next R
    AsJson = Text & "]"
End Function

Private Function OneAsJson(Cell As Range) As String
    Dim Value As Variant
    Value = Cell.Value2
    If IsError(Value) Then
        OneAsJson = """#N/A"""
    ElseIf IsEmpty(Value) Then
        OneAsJson = "null"
    ElseIf VarType(Value) = vbString Then
        Value = Replace(Replace(Value, "\", "\\"), """", "\""")
        OneAsJson = """" & Replace(Replace(Value, vbCr, " "), vbLf, " ") & """"
    ElseIf VarType(Value) = vbBoolean Then
        OneAsJson = IIf(Value, "true", "false")
    Else
        ' Str$ writes a decimal point whatever the locale.
        OneAsJson = Trim$(Str$(Value))
    End If
End Function

Private Function IsPlainNumber(Text As String) As Boolean
    Dim I As Long
    If Len(Text) = 0 Then Exit Function
    For I = 1 To Len(Text)
        If InStr("0123456789+-.eE", Mid$(Text, I, 1)) = 0 Then Exit Function
    Next I
    IsPlainNumber = InStr("0123456789", Right$(Text, 1)) > 0
End Function

' Posts JSON and returns the answer's text.
Private Function Post(Path As String, Body As String) As String
    Dim Request As Object
    Set Request = CreateObject("MSXML2.ServerXMLHTTP.6.0")
    Request.Open "POST", SERVICE & Path, False
    Request.setRequestHeader "Content-Type", "application/json; charset=utf-8"
    Request.send Body
    Post = Request.responseText
End Function
