/// Made by siegel.py.
const SIEGEL: f64 = 0.6904761904761905;
