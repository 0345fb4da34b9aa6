fn main() {
    println!("bubblepoint");
}
